#include "store/value_text.hpp"

#include <cassert>
#include <charconv>
#include <utility>

#include "store/error.hpp"

namespace scourbook::store {
namespace {

[[noreturn]] void fail(const char* what) {
  throw StoreError(StoreError::Kind::damaged, std::string("a stored list cannot be read: ") + what);
}

/// Only a tampered list overflows.
std::int64_t sum(std::int64_t a, std::int64_t b) {
  std::int64_t result = 0;
  if (__builtin_add_overflow(a, b, &result)) fail("number out of range");
  return result;
}
std::int64_t product(std::int64_t a, std::int64_t b) {
  std::int64_t result = 0;
  if (__builtin_mul_overflow(a, b, &result)) fail("number out of range");
  return result;
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

void append(std::string& text, Quality quality) {
  text += '"';
  text += word(quality);
  text += '"';
}

void append(std::string& text, const Place& place) {
  append(text, place.file);
  text += ',';
  append(text, place.line);
}

/// Reads what append() and the brackets made.
class Reader {
 public:
  explicit Reader(const std::string& text) : at_(text.data()), end_(at_ + text.size()) {}
  void expect(char c) {
    if (!take(c)) fail("wrong character");
  }
  [[nodiscard]] bool take(char c) {
    if (at_ == end_ || *at_ != c) return false;
    ++at_;
    return true;
  }
  void read(std::int64_t& value) {
    if (take('n')) {
      for (char c : {'u', 'l', 'l'}) expect(c);
      value = kMissing;
      return;
    }
    const auto [rest, fault] = std::from_chars(at_, end_, value);
    if (fault != std::errc{}) fail("no number");
    at_ = rest;
  }
  void read(Quality& quality) {
    expect('"');
    const char* from = at_;
    while (at_ != end_ && *at_ != '"') ++at_;
    const auto known = parse_quality({from, static_cast<std::size_t>(at_ - from)});
    expect('"');
    if (!known) fail("no quality");
    quality = *known;
  }
  void read(Place& place) {
    read(place.file);
    expect(',');
    read(place.line);
  }
  /// "[item,item,...]" to the end of the text; `item` reads one.
  template <class Item>
  void list(Item item) {
    expect('[');
    if (!take(']')) {
      do item();
      while (take(','));
      expect(']');
    }
    if (at_ != end_) fail("more text than expected");
  }

 private:
  const char* at_;
  const char* end_;
};

/// The item that `count` items after `item` must be for a run to go on.
template <class Item>
Item after(const Item& item, std::size_t) {
  return item;
}
Place after(const Place& place, std::size_t count) {
  return {place.file, sum(place.line, static_cast<std::int64_t>(count))};
}

template <class Item>
std::string write_runs(const std::vector<Item>& items) {
  std::string text = "[";
  for (std::size_t i = 0; i < items.size(); ++i) {
    if (i > 0 && items[i] == after(items[i - 1], 1)) continue;
    if (i > 0) text += ',';
    text += '[';
    append(text, static_cast<std::int64_t>(i));
    text += ',';
    append(text, items[i]);
    text += ']';
  }
  return text + "]";
}

template <class Item>
std::vector<Item> read_runs(const std::string& json, std::size_t count) {
  std::vector<Item> items;
  items.reserve(count);
  Item first{};
  std::size_t begin = 0;
  const auto fill = [&](std::size_t until) {
    while (items.size() < until) items.push_back(after(first, items.size() - begin));
  };
  Reader reader(json);
  reader.list([&] {
    std::int64_t from = 0;
    reader.expect('[');
    reader.read(from);
    reader.expect(',');
    const auto held = static_cast<std::int64_t>(items.size());
    if (from < held || (held == 0 && from != 0) || from >= static_cast<std::int64_t>(count)) {
      fail("runs out of order");
    }
    fill(static_cast<std::size_t>(from));
    reader.read(first);
    begin = items.size();
    items.push_back(first);
    reader.expect(']');
  });
  if (items.empty() && count > 0) fail("no runs");
  fill(count);
  return items;
}

/// The common spacing, 0 where there is none.
std::int64_t step_of(const std::vector<std::int64_t>& time_ms) {
  if (time_ms.size() < 2) return 0;
  const std::int64_t step = time_ms[1] - time_ms[0];
  for (std::size_t i = 2; i < time_ms.size(); ++i) {
    if (time_ms[i] - time_ms[i - 1] != step) return 0;
  }
  return step;
}

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
  reader.list([&] { reader.read(items.emplace_back()); });
  return items;
}

ValueText values_text(const std::vector<std::int64_t>& time_ms, const std::vector<std::int64_t>& value) {
  assert(time_ms.size() == value.size());
  ValueText text;
  text.first_ms = time_ms.empty() ? 0 : time_ms.front();
  text.step_ms = step_of(time_ms);
  if (text.step_ms > 0) {
    text.json = integers_json(value);
    return text;
  }
  text.json = "[";
  for (std::size_t i = 0; i < value.size(); ++i) {
    if (i > 0) text.json += ',';
    text.json += '[';
    append(text.json, time_ms[i] - text.first_ms);
    text.json += ',';
    append(text.json, value[i]);
    text.json += ']';
  }
  text.json += ']';
  return text;
}

TimedValues parse_values(const std::string& json, std::int64_t first_ms, std::int64_t step_ms) {
  TimedValues values;
  if (step_ms > 0) {
    values.value = parse_integers(json);
    values.time_ms.reserve(values.value.size());
    (void)sum(first_ms, product(step_ms, static_cast<std::int64_t>(values.value.size())));
    for (std::size_t i = 0; i < values.value.size(); ++i) {
      values.time_ms.push_back(first_ms + step_ms * static_cast<std::int64_t>(i));
    }
    return values;
  }
  Reader reader(json);
  reader.list([&] {
    reader.expect('[');
    std::int64_t offset = 0;
    reader.read(offset);
    values.time_ms.push_back(sum(first_ms, offset));
    reader.expect(',');
    reader.read(values.value.emplace_back());
    reader.expect(']');
  });
  for (std::size_t i = 1; i < values.time_ms.size(); ++i) {
    if (values.time_ms[i] <= values.time_ms[i - 1]) fail("times do not rise");
  }
  return values;
}

std::string runs_json(const std::vector<std::int64_t>& items) {
  return write_runs(items);
}
std::vector<std::int64_t> parse_runs(const std::string& json, std::size_t count) {
  return read_runs<std::int64_t>(json, count);
}
std::string quality_runs_json(const std::vector<Quality>& items) {
  return write_runs(items);
}
std::vector<Quality> parse_quality_runs(const std::string& json, std::size_t count) {
  return read_runs<Quality>(json, count);
}
std::string line_runs_json(const std::vector<Place>& items) {
  return write_runs(items);
}
std::vector<Place> parse_line_runs(const std::string& json, std::size_t count) {
  return read_runs<Place>(json, count);
}

}  // namespace scourbook::store
