// One requirement on a band, and the margin a response has inside it.
#pragma once

#include <string_view>

namespace bandwright {

enum class GoalQuantity { return_loss, transducer_gain };
enum class GoalBound { at_least, at_most, best };  // best: make it as good as possible

std::string_view quantity_name(GoalQuantity quantity);

// margin = weight * (value - bound) for at_least, weight * (bound - value) for at_most and
// weight * value for best. All in dB; a transducer gain is 0 dB or less.
struct Goal {
  GoalQuantity quantity = GoalQuantity::return_loss;
  GoalBound bound = GoalBound::at_least;
  double from_hz = 0;
  double to_hz = 0;
  double bound_db = 0;
  double weight = 1;

  double margin_db(double value_db) const {
    switch (bound) {
      case GoalBound::at_least:
        return weight * (value_db - bound_db);
      case GoalBound::at_most:
        return weight * (bound_db - value_db);
      case GoalBound::best:
        break;
    }
    return weight * value_db;
  }
};

}  // namespace bandwright
