#pragma once
// Where a book lies: what is no book, and what kind of disk it is on. No SQL here.

#include <string>

namespace scourbook::store {

/// Throws StoreError not_a_book (or io where it cannot be read) for what cannot be a book, before SQLite sees
/// it, so that the message says what it is.
void require_likely_book(const std::string& path);

/// Name of the network file system with this statfs type ("NFS"), null for any other. Locks across machines
/// cannot be relied on there, and SQLite's write-ahead log needs memory shared by all who open the book.
[[nodiscard]] const char* network_name(long type);
/// Warns where the book lies on one.
void warn_on_network(const std::string& path);

/// Removes the book and SQLite's files beside it, quietly.
void remove_files(const std::string& path);

/// "file:...?immutable=1": SQLite's name for a file that nobody changes while it is read.
[[nodiscard]] std::string unchanging_uri(const std::string& path);

}  // namespace scourbook::store
