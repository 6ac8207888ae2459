// Requests the tests of this folder begin with.
#pragma once

#include <string>

#include "server/api/decode_request.h"
#include "server/api/json.h"

namespace bandwright {

// A complete job request over sampled data from 140 to 160 MHz.
inline Json job_request() {
  return Json::parse(R"({
    "name": "whip",
    "load": {"samples": {"frequency_hz": [140e6, 150e6, 160e6],
                         "s_re": [0.55, 0.37, 0.11], "s_im": [-0.72, -0.80, -0.84]}},
    "template": {"elements": [
      {"place": "shunt", "kind": ["inductor", "capacitor"]},
      {"place": "series", "kind": "inductor", "optional": true}]},
    "goals": [{"quantity": "return_loss", "from_hz": "140 MHz", "to_hz": 160e6,
               "at_least_db": 6}],
    "parts": {"inductor": {"values": "E12"}},
    "tolerance": {"samples": 100}
  })");
}

inline Json analysis_request() {
  Json request = job_request();
  request.erase("template");
  request["network"] = Json::parse(R"([
    {"place": "series", "kind": "inductor", "inductance_h": "39 nH"},
    {"place": "shunt", "kind": "capacitor", "capacitance_f": 1.2e-11, "label": "12 pF",
     "tolerance_percent": 2}])");
  return request;
}

// job_request() with the value at `pointer` replaced or added.
inline Json job_request_with(const std::string& pointer, const std::string& json) {
  Json request = job_request();
  request[Json::json_pointer(pointer)] = Json::parse(json);
  return request;
}

}  // namespace bandwright
