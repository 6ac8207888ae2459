#include "server/http/peer_limits.h"

namespace bandwright {

PeerLimits::Admission PeerLimits::admit(const std::string& peer) {
  const std::lock_guard lock(mutex_);
  const auto found = served_.find(peer);
  const int of_peer = found == served_.end() ? 0 : found->second;
  if (all_ < max_all_ && of_peer < max_a_peer_) {
    ++all_;
    ++served_[peer];
    return Admission::served;
  }
  if (refused_ == max_refused_) return Admission::dropped;
  ++refused_;
  return Admission::refused;
}

void PeerLimits::release(const std::string& peer, Admission admission) {
  const std::lock_guard lock(mutex_);
  if (admission == Admission::refused) --refused_;
  if (admission != Admission::served) return;
  --all_;
  const auto found = served_.find(peer);
  if (--found->second == 0) served_.erase(found);
}

int PeerLimits::open() const {
  const std::lock_guard lock(mutex_);
  return all_;
}

}  // namespace bandwright
