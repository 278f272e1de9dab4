#include "fieldfile/bytes.hpp"

#include <fcntl.h>
#include <openssl/evp.h>
#include <sys/stat.h>
#include <unistd.h>
#include <zlib.h>

#include <algorithm>
#include <array>
#include <cassert>
#include <cerrno>
#include <cstring>
#include <system_error>
#include <vector>

namespace scourbook::fieldfile {
namespace {

constexpr std::size_t kBlock = 256 * 1024;

bool ends_with(std::string_view text, std::string_view end) {
  return text.size() >= end.size() && text.substr(text.size() - end.size()) == end;
}

std::string reason_of(int error) {
  return std::generic_category().message(error);
}

}  // namespace

std::size_t MemoryBytes::read(char* to, std::size_t size) {
  const std::size_t count = std::min(size, rest_.size());
  std::memcpy(to, rest_.data(), count);
  rest_.remove_prefix(count);
  return count;
}

/// The file as given: every byte that leaves it is counted and hashed.
struct FileBytes::Raw {
  int descriptor = -1;
  std::int64_t count = 0;
  std::string held_back;  // first bytes, looked at to know gzip, not yet handed out
  EVP_MD_CTX* hash = EVP_MD_CTX_new();
  std::function<void(std::int64_t)> progress;

  Raw() { EVP_DigestInit_ex(hash, EVP_sha256(), nullptr); }
  ~Raw() {
    EVP_MD_CTX_free(hash);
    if (descriptor >= 0) ::close(descriptor);
  }
  Raw(const Raw&) = delete;
  Raw& operator=(const Raw&) = delete;

  /// Bytes read, 0 at the end, -1 with errno.
  ssize_t read_file(char* to, std::size_t size) {
    ssize_t got = 0;
    do {
      got = ::read(descriptor, to, size);
    } while (got < 0 && errno == EINTR);
    if (got <= 0) return got;
    count += got;
    EVP_DigestUpdate(hash, to, static_cast<std::size_t>(got));
    if (progress) progress(got);
    return got;
  }

  ssize_t read(char* to, std::size_t size) {
    if (held_back.empty()) return read_file(to, size);
    const std::size_t given = std::min(size, held_back.size());
    std::memcpy(to, held_back.data(), given);
    held_back.erase(0, given);
    return static_cast<ssize_t>(given);
  }

  /// The first two bytes, without handing them out; fewer where the file is shorter.
  std::string_view look_at_start() {
    std::array<char, 2> start{};
    while (held_back.size() < start.size()) {
      const ssize_t got = read_file(start.data(), start.size() - held_back.size());
      if (got <= 0) break;
      held_back.append(start.data(), static_cast<std::size_t>(got));
    }
    return held_back;
  }
};

struct FileBytes::Gzip {
  z_stream stream{};
  std::vector<char> packed = std::vector<char>(kBlock);
  bool between_members = true;  // nothing of a member read yet, or one has just ended
  bool any_member = false;

  Gzip() {
    // 16 asks zlib for the gzip wrapper, 15 is the largest window.
    [[maybe_unused]] const int ready = inflateInit2(&stream, 15 + 16);
    assert(ready == Z_OK);
  }
  ~Gzip() { inflateEnd(&stream); }
  Gzip(const Gzip&) = delete;
  Gzip& operator=(const Gzip&) = delete;
};

FileBytes::FileBytes(const std::string& path, std::function<void(std::int64_t)> progress)
    : raw_(std::make_unique<Raw>()) {
  raw_->progress = std::move(progress);
  open(path);
  if (fault_.any()) return;
  const bool packed = raw_->look_at_start() == "\x1F\x8B";
  if (packed) {
    gzip_ = std::make_unique<Gzip>();
  } else if (ends_with(path, ".gz")) {
    fault_ = {"the name ends in .gz but the content is not gzip", "a file packed by gzip",
              "pack it again, or take the .gz off its name"};
  }
}

FileBytes::~FileBytes() = default;

void FileBytes::open(const std::string& path) {
  struct stat status {};
  if (::stat(path.c_str(), &status) != 0) {
    fault_ =
        errno == ENOENT
            ? ByteFault{"there is no such file", "the name of a field file", "check the name and the folder"}
            : ByteFault{"cannot be read: " + reason_of(errno), "a readable file", "check the rights"};
    return;
  }
  if (S_ISDIR(status.st_mode)) {
    fault_ = {"is a folder, not a file", "the name of a field file", "name the files in it"};
    return;
  }
  if (!S_ISREG(status.st_mode)) {
    fault_ = {"is no plain file", "a file on disk", "save the data to a file first"};
    return;
  }
  raw_->descriptor = ::open(path.c_str(), O_RDONLY | O_CLOEXEC);
  if (raw_->descriptor < 0) {
    fault_ = {"cannot be read: " + reason_of(errno), "a readable file", "check the rights"};
  }
}

std::size_t FileBytes::refuse(ByteFault fault) {
  fault_ = std::move(fault);
  return 0;
}

std::size_t FileBytes::read(char* to, std::size_t size) {
  if (fault_.any()) return 0;
  if (gzip_) return read_gzip(to, size);
  const ssize_t got = raw_->read(to, size);
  if (got < 0) return refuse({"cannot be read: " + reason_of(errno), "a readable file", ""});
  return static_cast<std::size_t>(got);
}

/// Gives zlib more packed bytes; false at the end of the file and on a fault.
bool FileBytes::refill_gzip() {
  const ssize_t got = raw_->read(gzip_->packed.data(), gzip_->packed.size());
  if (got < 0) {
    fault_ = {"cannot be read: " + reason_of(errno), "a readable file", ""};
    return false;
  }
  gzip_->stream.next_in = reinterpret_cast<Bytef*>(gzip_->packed.data());
  gzip_->stream.avail_in = static_cast<uInt>(got);
  return got > 0;
}

// A gzip file is one member or several, end to end (RFC 1952, section 2.2).
std::size_t FileBytes::read_gzip(char* to, std::size_t size) {
  z_stream& stream = gzip_->stream;
  stream.next_out = reinterpret_cast<Bytef*>(to);
  stream.avail_out = static_cast<uInt>(std::min(size, kBlock));
  const uInt asked = stream.avail_out;
  while (stream.avail_out == asked) {
    if (stream.avail_in == 0 && !refill_gzip()) {
      if (fault_.any() || (gzip_->between_members && gzip_->any_member)) return 0;
      return refuse({"the gzip data end too early", "a whole gzip file", "copy or pack the file again"});
    }
    if (gzip_->between_members) {
      inflateReset(&stream);
      gzip_->between_members = false;
    }
    const int went = inflate(&stream, Z_NO_FLUSH);
    if (went == Z_STREAM_END) {
      gzip_->between_members = true;
      gzip_->any_member = true;
    } else if (went != Z_OK && went != Z_BUF_ERROR) {
      return refuse({"the gzip data are damaged", "a whole gzip file", "copy or pack the file again"});
    }
  }
  return asked - stream.avail_out;
}

std::int64_t FileBytes::bytes() const {
  return raw_->count;
}

std::string FileBytes::sha256() const {
  // A copy is finished, so that the running hash stays usable.
  std::array<unsigned char, EVP_MAX_MD_SIZE> digest{};
  unsigned int length = 0;
  EVP_MD_CTX* copy = EVP_MD_CTX_new();
  EVP_MD_CTX_copy_ex(copy, raw_->hash);
  EVP_DigestFinal_ex(copy, digest.data(), &length);
  EVP_MD_CTX_free(copy);
  constexpr std::string_view kHex = "0123456789abcdef";
  std::string hex;
  for (unsigned int i = 0; i < length; ++i) {
    hex += kHex[digest[i] >> 4];
    hex += kHex[digest[i] & 15];
  }
  return hex;
}

std::int64_t file_size(const std::string& path) {
  struct stat status {};
  if (::stat(path.c_str(), &status) != 0 || !S_ISREG(status.st_mode)) return 0;
  return status.st_size;
}

}  // namespace scourbook::fieldfile
