// The two JSON document types of this folder and the one way they are written.
#pragma once

#include <nlohmann/json.hpp>
#include <string>

namespace bandwright {

// Requests: members sorted by name, so that equal requests have equal text.
using Json = nlohmann::json;
// Answers: members in the order they were added.
using OrderedJson = nlohmann::ordered_json;

// Compact text. Bytes that are not UTF-8 are replaced, never thrown over.
template <class Document>
std::string json_text(const Document& document) {
  return document.dump(-1, ' ', false, Document::error_handler_t::replace);
}

}  // namespace bandwright
