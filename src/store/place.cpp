#include "store/place.hpp"

#include <fmt/format.h>
#include <spdlog/spdlog.h>
#include <sys/statfs.h>

#include <array>
#include <filesystem>
#include <fstream>
#include <iterator>
#include <string_view>

#include "store/error.hpp"

namespace scourbook::store {
namespace {

namespace fs = std::filesystem;
using Kind = StoreError::Kind;

constexpr std::string_view kSqliteHead("SQLite format 3\0", 16);

[[noreturn]] void no_book(const std::string& path, const std::string& why) {
  throw StoreError(Kind::not_a_book, path + " is no book: " + why);
}

/// statfs types (statfs(2) and linux/magic.h).
struct NetworkType {
  long type;
  const char* name;
};
constexpr std::array<NetworkType, 11> kNetworkTypes{{{0x6969, "NFS"},
                                                     {0x517b, "SMB"},
                                                     {0xff534d42, "CIFS"},
                                                     {0xfe534d42, "SMB2"},
                                                     {0x5346414f, "AFS"},
                                                     {0x6b414653, "AFS"},
                                                     {0x73757245, "Coda"},
                                                     {0x00c36400, "Ceph"},
                                                     {0x01021997, "9P"},
                                                     {0x564c, "NCP"},
                                                     {0x0bd00bd0, "Lustre"}}};

}  // namespace

void require_likely_book(const std::string& path) {
  std::error_code fault;
  const auto status = fs::status(path, fault);
  if (fault && status.type() == fs::file_type::none) {
    throw StoreError(Kind::io, path + " cannot be reached: " + fault.message());
  }
  if (!fs::exists(status)) no_book(path, "there is no such file; scourbook new makes a book");
  if (fs::is_directory(status)) no_book(path, "it is a folder");
  if (!fs::is_regular_file(status)) no_book(path, "it is no plain file");
  std::ifstream in(path, std::ios::binary);
  if (!in) throw StoreError(Kind::io, path + " cannot be read; look at the rights of the file");
  std::array<char, kSqliteHead.size()> head{};
  in.read(head.data(), head.size());
  if (in.gcount() == 0) no_book(path, "it is empty");
  if (std::string_view(head.data(), static_cast<std::size_t>(in.gcount())) != kSqliteHead) {
    no_book(path, "it is a file of another kind");
  }
}

const char* network_name(long type) {
  for (const NetworkType& known : kNetworkTypes) {
    if (known.type == (type & 0xffffffffL)) return known.name;
  }
  return nullptr;
}

void warn_on_network(const std::string& path) {
  struct statfs info {};
  if (statfs(path.c_str(), &info) != 0) return;
  if (const char* name = network_name(static_cast<long>(info.f_type))) {
    spdlog::warn(
        "{} lies on a network file system ({}), where locks cannot be relied on: keep books on a local disk, "
        "and "
        "copies elsewhere",
        path, name);
  }
}

void remove_files(const std::string& path) {
  std::error_code ignored;
  for (const char* ending : {"", "-wal", "-shm", "-journal"}) fs::remove(path + ending, ignored);
}

std::string unchanging_uri(const std::string& path) {
  std::string uri = "file:";
  for (const char c : fs::absolute(path).string()) {
    if (c == '%' || c == '?' || c == '#') {
      fmt::format_to(std::back_inserter(uri), "%{:02x}",
                     static_cast<unsigned>(static_cast<unsigned char>(c)));
    } else {
      uri += c;
    }
  }
  return uri + "?immutable=1";
}

}  // namespace scourbook::store
