// Arrays of whole numbers as JSON text: written and read by hand, since a decade of stage has 350,000 of
// them.

#include <charconv>
#include <string>

#include "store/error.hpp"
#include "store/piece.hpp"

namespace scourbook::store {
namespace {

[[noreturn]] void fail(const char* what) {
  throw StoreError(StoreError::Kind::damaged,
                   std::string("a stored list of numbers cannot be read: ") + what);
}

void append(std::string& text, std::int64_t item) {
  if (item == kMissing) {
    text += "null";
    return;
  }
  char buffer[24];
  const auto end = std::to_chars(buffer, buffer + sizeof buffer, item).ptr;
  text.append(buffer, end);
}

/// Reads what append() and the brackets made.
class Reader {
 public:
  explicit Reader(const std::string& text) : at_(text.data()), end_(at_ + text.size()) {}
  void expect(char c) {
    if (at_ == end_ || *at_ != c) fail("wrong character");
    ++at_;
  }
  [[nodiscard]] bool take(char c) {
    if (at_ == end_ || *at_ != c) return false;
    ++at_;
    return true;
  }
  [[nodiscard]] std::int64_t number() {
    if (take('n')) {
      expect('u');
      expect('l');
      expect('l');
      return kMissing;
    }
    std::int64_t value = 0;
    const auto [rest, fault] = std::from_chars(at_, end_, value);
    if (fault != std::errc{}) fail("no number");
    at_ = rest;
    return value;
  }
  void finish() const {
    if (at_ != end_) fail("more text than expected");
  }

 private:
  const char* at_;
  const char* end_;
};

}  // namespace

std::string integers_json(const std::vector<std::int64_t>& items) {
  std::string text = "[";
  text.reserve(items.size() * 6 + 2);
  for (std::size_t i = 0; i < items.size(); ++i) {
    if (i > 0) text += ',';
    append(text, items[i]);
  }
  return text + "]";
}

std::vector<std::int64_t> parse_integers(const std::string& json) {
  std::vector<std::int64_t> items;
  items.reserve(json.size() / 4);
  Reader reader(json);
  reader.expect('[');
  if (!reader.take(']')) {
    do items.push_back(reader.number());
    while (reader.take(','));
    reader.expect(']');
  }
  reader.finish();
  return items;
}

std::string runs_json(const std::vector<std::int64_t>& items) {
  std::string text = "[";
  for (std::size_t i = 0; i < items.size(); ++i) {
    if (i > 0 && items[i] == items[i - 1]) continue;
    if (i > 0) text += ',';
    text += '[';
    append(text, static_cast<std::int64_t>(i));
    text += ',';
    append(text, items[i]);
    text += ']';
  }
  return text + "]";
}

std::vector<std::int64_t> parse_runs(const std::string& json, std::size_t count) {
  std::vector<std::int64_t> items;
  items.reserve(count);
  Reader reader(json);
  reader.expect('[');
  std::int64_t item = 0;
  bool any = false;
  while (!reader.take(']')) {
    if (any) reader.expect(',');
    reader.expect('[');
    const std::int64_t from = reader.number();
    reader.expect(',');
    const bool in_order = any ? from > static_cast<std::int64_t>(items.size()) : from == 0;
    if (!in_order || from < 0 || from >= static_cast<std::int64_t>(count)) fail("runs out of order");
    items.resize(static_cast<std::size_t>(from), item);
    item = reader.number();
    items.push_back(item);
    reader.expect(']');
    any = true;
  }
  reader.finish();
  if (!any && count > 0) fail("no runs");
  items.resize(count, item);
  return items;
}

}  // namespace scourbook::store
