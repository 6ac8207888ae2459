#include "solver/rf/goal.h"

namespace bandwright {

std::string_view quantity_name(GoalQuantity quantity) {
  return quantity == GoalQuantity::return_loss ? "return_loss" : "transducer_gain";
}

}  // namespace bandwright
