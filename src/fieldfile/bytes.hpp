#pragma once
// The bytes of a field file: read in blocks, unpacked where they are gzip, hashed as given.

#include <cstdint>
#include <functional>
#include <memory>
#include <string>
#include <string_view>

namespace scourbook::fieldfile {

/// Why bytes could not be read, in the words of a finding.
struct ByteFault {
  std::string fault;
  std::string expected;
  std::string remedy;
  [[nodiscard]] bool any() const { return !fault.empty(); }
};

/// Bytes one after another.
class ByteSource {
 public:
  virtual ~ByteSource() = default;
  /// Fills up to `size` bytes at `to`; 0 at the end, and from a fault on.
  [[nodiscard]] virtual std::size_t read(char* to, std::size_t size) = 0;
  [[nodiscard]] virtual const ByteFault& fault() const = 0;
};

/// Bytes held by the caller; `text` must outlive it.
class MemoryBytes : public ByteSource {
 public:
  explicit MemoryBytes(std::string_view text) : rest_(text) {}
  [[nodiscard]] std::size_t read(char* to, std::size_t size) override;
  [[nodiscard]] const ByteFault& fault() const override { return none_; }

 private:
  std::string_view rest_;
  ByteFault none_;
};

/// A file on disk. Gzip (RFC 1952) is known by its first two bytes and unpacked; a name ending in .gz without
/// them is a fault, so are truncated or damaged gzip, a directory, a missing or unreadable file.
class FileBytes : public ByteSource {
 public:
  /// `progress(bytes)` is told how many bytes of the file were read since the last call; may be empty.
  explicit FileBytes(const std::string& path, std::function<void(std::int64_t)> progress = {});
  ~FileBytes() override;
  FileBytes(const FileBytes&) = delete;
  FileBytes& operator=(const FileBytes&) = delete;

  [[nodiscard]] std::size_t read(char* to, std::size_t size) override;
  [[nodiscard]] const ByteFault& fault() const override { return fault_; }

  /// Size and SHA-256 (64 hex digits) of the file as given, compressed or not. Right once read() has come to
  /// the end.
  [[nodiscard]] std::int64_t bytes() const;
  [[nodiscard]] std::string sha256() const;

 private:
  struct Raw;
  struct Gzip;
  void open(const std::string& path);
  [[nodiscard]] std::size_t read_gzip(char* to, std::size_t size);
  [[nodiscard]] bool refill_gzip();
  [[nodiscard]] std::size_t refuse(ByteFault fault);

  std::unique_ptr<Raw> raw_;
  std::unique_ptr<Gzip> gzip_;
  ByteFault fault_;
};

/// Size of a plain file in bytes, 0 where it is none.
[[nodiscard]] std::int64_t file_size(const std::string& path);

}  // namespace scourbook::fieldfile
