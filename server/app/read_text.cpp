#include "server/app/read_text.h"

#include <array>
#include <fstream>
#include <iostream>
#include <stdexcept>

namespace bandwright {
namespace {

constexpr std::size_t kMostBytes = 64u << 20;

std::string read_all(std::istream& input, const std::string& name) {
  std::string text;
  std::array<char, 1 << 16> chunk{};
  do {
    input.read(chunk.data(), chunk.size());
    text.append(chunk.data(), static_cast<std::size_t>(input.gcount()));
    if (text.size() > kMostBytes) throw std::runtime_error(name + " is longer than 64 MiB");
  } while (input);
  if (input.bad()) throw std::runtime_error("cannot read " + name);
  return text;
}

}  // namespace

std::string read_text_file(const std::string& name) {
  if (name == "-") return read_all(std::cin, "standard input");
  std::ifstream file(name, std::ios::binary);
  if (!file) throw std::runtime_error("cannot open " + name);
  return read_all(file, name);
}

}  // namespace bandwright
