// A loop whose turns may run on several threads.
//
// Turn i must write only what belongs to turn i; then the result does not depend on the number of
// threads. Exceptions thrown by a turn are passed on to the caller after all threads have ended.
#pragma once

#include <cstddef>
#include <functional>

namespace bandwright {

void parallel_for(int threads, std::size_t count, const std::function<void(std::size_t)>& turn);

}  // namespace bandwright
