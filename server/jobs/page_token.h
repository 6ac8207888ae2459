// Where a list goes on, as an opaque token.
//
// A token names the place by order of creation, so pages stay put while jobs come and go.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <string_view>

namespace bandwright {

std::string page_token(std::int64_t before);
// Nothing unless `token` is one that page_token() makes.
std::optional<std::int64_t> read_page_token(std::string_view token);

}  // namespace bandwright
