#include "fieldfile/lines.hpp"

#include <algorithm>
#include <cstring>

namespace scourbook::fieldfile {
namespace {

constexpr std::size_t kBlock = 256 * 1024;
constexpr std::string_view kByteOrderMark = "\xEF\xBB\xBF";

}  // namespace

LineReader::LineReader(ByteSource& source, const Limits& limits) : source_(source), limits_(limits) {
  buffer_.resize(std::min(kBlock, limits_.longest_line + 2));
}

bool LineReader::fill() {
  if (begin_ > 0) {
    std::memmove(buffer_.data(), buffer_.data() + begin_, end_ - begin_);
    end_ -= begin_;
    begin_ = 0;
  }
  // Room for the longest line and its CRLF, never more.
  if (end_ == buffer_.size()) buffer_.resize(std::min(buffer_.size() * 2, limits_.longest_line + 2));
  const std::size_t got = source_.read(buffer_.data() + end_, buffer_.size() - end_);
  end_ += got;
  return got > 0;
}

LineReader::Status LineReader::next(std::string_view& line) {
  ++number_;
  std::size_t searched = 0;  // bytes behind begin_ known to hold no LF
  bool more = true;
  const char* feed = nullptr;
  while (true) {
    const char* from = buffer_.data() + begin_;
    feed = static_cast<const char*>(std::memchr(from + searched, '\n', end_ - begin_ - searched));
    if (feed != nullptr) break;
    searched = end_ - begin_;
    if (searched >= limits_.longest_line + 2) return Status::too_long;
    if (!(more = fill())) break;
  }
  if (source_.fault().any()) return Status::fault;
  if (!more && begin_ == end_) return Status::end;
  const char* first = buffer_.data() + begin_;
  const std::size_t length = feed != nullptr ? static_cast<std::size_t>(feed - first) : end_ - begin_;
  begin_ = feed != nullptr ? begin_ + length + 1 : end_;
  line = std::string_view(first, length);
  if (!line.empty() && line.back() == '\r') line.remove_suffix(1);
  if (number_ == 1 && line.substr(0, kByteOrderMark.size()) == kByteOrderMark) {
    line.remove_prefix(kByteOrderMark.size());
  }
  return line.size() > limits_.longest_line ? Status::too_long : Status::line;
}

}  // namespace scourbook::fieldfile
