#pragma once
// Seams to the world outside, for tests: the clock, the wait for a lock, and the file system under SQLite.
// Not used unless set.

#include <cstdint>
#include <functional>
#include <string>

#include "terms/time.hpp"

namespace scourbook::store {

/// Replaces the clock that acts are timed by; an empty function brings the system's clock back.
void use_clock(std::function<Instant()> clock);
[[nodiscard]] Instant now();

/// How long one waits for another who is writing: 10 s unless set.
void use_wait(Millis wait);
[[nodiscard]] Millis wait_for_lock();

/// A file system on which the power fails. It passes everything on to the real one and counts what changes
/// files: writes, truncations, syncs, deletions. At operation `fail_at` (from 1) the power goes: what was
/// written since the last sync of each file is undone, and every later operation fails until `restore`.
class FailingFileSystem {
 public:
  FailingFileSystem();   ///< books are opened on it from here on
  ~FailingFileSystem();  ///< and on the real one again
  FailingFileSystem(const FailingFileSystem&) = delete;
  FailingFileSystem& operator=(const FailingFileSystem&) = delete;

  /// What becomes of writes that were not synced.
  enum class Unsynced { lost, kept, half_of_the_last };
  void cut_at(std::int64_t fail_at, Unsynced unsynced);
  void restore();                                 ///< power is back
  [[nodiscard]] std::int64_t operations() const;  ///< since the last cut_at or restore
  [[nodiscard]] bool is_cut() const;
};

/// The name of the SQLite VFS that books are opened with; null: SQLite's own.
[[nodiscard]] const char* file_system_name();

}  // namespace scourbook::store
