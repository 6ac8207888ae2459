// A program run by a test, with its output caught and its end awaited.
//
// Waits give up after 30 seconds and kill the program, so that a hang fails a test.
#pragma once

#include <fcntl.h>
#include <poll.h>
#include <sys/wait.h>
#include <unistd.h>

#include <cerrno>
#include <chrono>
#include <csignal>
#include <stdexcept>
#include <string>
#include <vector>

namespace bandwright {

class ChildProcess {
 public:
  ChildProcess(const std::string& program, const std::vector<std::string>& arguments,
               const std::string& input = "") {
    int in[2], out[2], err[2];
    if (::pipe2(in, O_CLOEXEC) != 0 || ::pipe2(out, O_CLOEXEC) != 0 ||
        ::pipe2(err, O_CLOEXEC) != 0) {
      throw std::runtime_error("no pipe");
    }
    std::vector<std::string> words = arguments;
    words.insert(words.begin(), program);
    std::vector<char*> argv;
    for (std::string& word : words) argv.push_back(word.data());
    argv.push_back(nullptr);
    pid_ = ::fork();
    if (pid_ == 0) {
      ::dup2(in[0], 0);
      ::dup2(out[1], 1);
      ::dup2(err[1], 2);
      ::execv(program.c_str(), argv.data());
      ::_exit(127);
    }
    ::close(in[0]);
    ::close(out[1]);
    ::close(err[1]);
    output_ = out[0];
    error_ = err[0];
    // Fits the pipe: tests send a few bytes.
    const ssize_t written = ::write(in[1], input.data(), input.size());
    ::close(in[1]);
    if (written != static_cast<ssize_t>(input.size())) throw std::runtime_error("input too long");
  }
  ~ChildProcess() {
    if (pid_ > 0) {
      ::kill(pid_, SIGKILL);
      ::waitpid(pid_, nullptr, 0);
    }
    ::close(output_);
    ::close(error_);
  }
  ChildProcess(const ChildProcess&) = delete;
  ChildProcess& operator=(const ChildProcess&) = delete;

  void signal(int number) const { ::kill(pid_, number); }

  // The rest of the line of standard error that holds `text`; "" if the program ends without it.
  std::string wait_for_error_line(const std::string& text) {
    for (;;) {
      const std::size_t at = error_text.find(text);
      const std::size_t end = at == std::string::npos ? at : error_text.find('\n', at);
      if (end != std::string::npos) return error_text.substr(at, end - at);
      if (!read_some()) return "";
    }
  }

  // The exit status, or 1000 and the signal that ended it. Output and error are complete then.
  int wait() {
    while (read_some()) {
    }
    int status = 0;
    ::waitpid(pid_, &status, 0);
    pid_ = -1;
    return WIFEXITED(status) ? WEXITSTATUS(status) : 1000 + WTERMSIG(status);
  }

  std::string output_text;
  std::string error_text;

 private:
  // False once both streams have ended.
  bool read_some() {
    pollfd streams[2] = {{output_open_ ? output_ : -1, POLLIN, 0},
                         {error_open_ ? error_ : -1, POLLIN, 0}};
    if (!output_open_ && !error_open_) return false;
    const auto left = std::chrono::duration_cast<std::chrono::milliseconds>(
        give_up_ - std::chrono::steady_clock::now());
    const int ready = left.count() > 0 ? ::poll(streams, 2, static_cast<int>(left.count())) : 0;
    if (ready == 0) {
      ::kill(pid_, SIGKILL);
      return false;
    }
    if (streams[0].revents != 0) output_open_ = take(output_, output_text);
    if (streams[1].revents != 0) error_open_ = take(error_, error_text);
    return true;
  }

  static bool take(int stream, std::string& text) {
    char chunk[4096];
    const ssize_t count = ::read(stream, chunk, sizeof chunk);
    if (count > 0) text.append(chunk, static_cast<std::size_t>(count));
    return count > 0 || (count < 0 && errno == EINTR);
  }

  pid_t pid_ = -1;
  int output_ = -1;
  int error_ = -1;
  bool output_open_ = true;
  bool error_open_ = true;
  const std::chrono::steady_clock::time_point give_up_ =
      std::chrono::steady_clock::now() + std::chrono::seconds(30);
};

}  // namespace bandwright
