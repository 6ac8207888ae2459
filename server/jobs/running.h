// The runs of this process that are under way, and the handle on each.
//
// Thread safety: none; the service's mutex guards it, except the RunControl inside, which anyone
// may use.
#pragma once

#include <map>
#include <memory>
#include <string>

#include "server/message/job.h"
#include "solver/base/run_control.h"

namespace bandwright {

struct Run {
  std::string lease;
  RunControl control;
  bool returned = false;   // the executor is done; its outcome is being recorded
  bool abandoned = false;  // the job was given back; the outcome is not wanted
};

class Running {
 public:
  void add(const std::string& id, std::shared_ptr<Run> run) { runs_.emplace(id, std::move(run)); }
  void remove(const std::string& id) { runs_.erase(id); }
  bool empty() const { return runs_.empty(); }

  std::shared_ptr<Run> find(const std::string& id) const {
    const auto found = runs_.find(id);
    return found == runs_.end() ? nullptr : found->second;
  }

  // Marks and ends every run that has not returned; they are returned by the id of their job.
  std::map<std::string, std::shared_ptr<Run>> abandon() {
    std::map<std::string, std::shared_ptr<Run>> abandoned;
    for (const auto& [id, run] : runs_) {
      if (run->returned) continue;
      run->abandoned = true;
      run->control.request_cancel();
      abandoned.emplace(id, run);
    }
    return abandoned;
  }

 private:
  std::map<std::string, std::shared_ptr<Run>> runs_;
};

inline JobProgress progress_of(const RunControl& control) {
  const Progress p = control.progress();
  return {p.fraction, p.evaluations, p.topologies_done, p.topologies, p.best_margin_db};
}

}  // namespace bandwright
