// How many connections are open, in all and from each peer, and whether one more may be.
//
// A refused connection is answered with 503 and lives for a moment, so those are counted and
// limited too; beyond that limit a connection is dropped without an answer.
//
// Thread safety: all members may be called from any thread.
// Invariant: the counts of all peers add up to open().
#pragma once

#include <map>
#include <mutex>
#include <string>

namespace bandwright {

class PeerLimits {
 public:
  enum class Admission { served, refused, dropped };

  PeerLimits(int all, int a_peer, int refused)
      : max_all_(all), max_a_peer_(a_peer), max_refused_(refused) {}

  // Counts the connection, unless it is dropped. Give back with what was returned.
  Admission admit(const std::string& peer);
  void release(const std::string& peer, Admission admission);
  int open() const;

 private:
  const int max_all_;
  const int max_a_peer_;
  const int max_refused_;
  mutable std::mutex mutex_;
  std::map<std::string, int> served_;  // guarded by mutex_, as the two below
  int all_ = 0;
  int refused_ = 0;
};

}  // namespace bandwright
