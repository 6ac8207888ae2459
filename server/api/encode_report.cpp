#include "server/api/encode_report.h"

#include <cmath>
#include <stdexcept>

#include "server/api/encode_design.h"

namespace bandwright {
namespace {

OrderedJson progress_json(const Report& report) {
  OrderedJson out;
  out["fraction"] = 1.0;
  out["evaluations"] = report.evaluations;
  out["topologies_done"] = report.topologies_done;
  out["topologies"] = report.topologies;
  return out;
}

OrderedJson unmatched_json(const Unmatched& unmatched) {
  if (!std::isfinite(unmatched.return_loss_db) || !std::isfinite(unmatched.at_hz)) {
    throw std::logic_error("the unmatched return loss is not finite");
  }
  OrderedJson out;
  out["return_loss_db"] = unmatched.return_loss_db;
  out["at_hz"] = unmatched.at_hz;
  return out;
}

constexpr const char* kLimitNote =
    "No lossless network of any size can hold a better worst return loss in these bands, and no "
    "passive network a better worst transducer gain. Loss can improve a return loss beyond this, "
    "at the cost of efficiency.";

OrderedJson limit_json(const MatchLimit& limit) {
  OrderedJson out;
  out["return_loss_db"] = limit.return_loss_db;
  out["gain_db"] = limit.gain_db;
  out["error_db"] = limit.error_db;
  out["section"] = limit.section;
  out["tight"] = limit.tight;
  out["note"] = kLimitNote;
  return out;
}

}  // namespace

OrderedJson engine_json() {
  OrderedJson out;
  out["name"] = "bandwright";
  out["version"] = BANDWRIGHT_VERSION;
  return out;
}

const std::vector<std::string>& cautions() {
  static const std::vector<std::string> texts{
      "These results are computed from the data given, not measured: build and measure before "
      "relying on them.",
      "Transmitting needs a licence or an exemption and must respect the local limits for human "
      "exposure; exposure is not assessed here.",
      "A network of high Q reaches high voltage and current even at modest power, which can burn "
      "and destroy parts: stress gives the figures, checking them against part ratings is up to "
      "the designer.",
      "Local codes and licensed practice decide what may be built and operated."};
  return texts;
}

std::string report_text(const Report& report, const JobRequest& request) {
  OrderedJson out;
  out["engine"] = engine_json();
  out["progress"] = progress_json(report);
  out["stop_reason"] = stop_reason_name(report.stop_reason);
  out["reproducible"] = report.reproducible;
  out["assumptions"] = request.assumptions;
  out["warnings"] = report.warnings;
  out["cautions"] = cautions();
  out["unmatched"] = unmatched_json(report.unmatched);
  if (report.limit) out["limit"] = limit_json(*report.limit);
  out["designs"] = OrderedJson::array();
  int rank = 0;
  for (const Design& design : report.designs) {
    OrderedJson one;
    one["rank"] = ++rank;
    one.update(design_json(design, request.problem));
    out["designs"].push_back(std::move(one));
  }
  return json_text(out);
}

std::string analysis_text(const Design& design, const AnalysisRequest& request) {
  OrderedJson out;
  if (!request.name.empty()) out["name"] = request.name;
  out["engine"] = engine_json();
  out["seed"] = request.problem.search.seed;
  out["assumptions"] = request.assumptions;
  out["cautions"] = cautions();
  out.update(design_json(design, request.problem));
  return json_text(out);
}

}  // namespace bandwright
