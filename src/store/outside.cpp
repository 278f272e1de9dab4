#include "store/outside.hpp"

#include <sqlite3.h>

#include <cstring>
#include <new>
#include <utility>
#include <vector>

namespace scourbook::store {
namespace {

std::function<Instant()>& clock_in_use() {
  static std::function<Instant()> clock;
  return clock;
}

Millis wait_in_use = std::chrono::seconds(10);

constexpr const char* kName = "scourbook-failing";
bool in_use = false;

/// What was asked for and has come of it, common to all files.
struct Failure {
  std::int64_t operations = 0;
  std::int64_t at = 0;  ///< 0: never
  bool disk_full = false;
  FailingFileSystem::Unsynced unsynced = FailingFileSystem::Unsynced::lost;
  std::function<void()> then;  ///< called when the power has gone
  bool has_failed = false;
  bool just_failed = false;  ///< by the operation that is under way
};
Failure failure;

/// What a write since the last sync replaced.
struct Undo {
  sqlite3_int64 offset = 0;
  std::vector<char> before;
  sqlite3_int64 size_before = 0;
};

struct File {
  sqlite3_file base{};
  sqlite3_file* real = nullptr;
  std::vector<Undo>* undo = nullptr;
};
std::vector<File*> open_files;

File& of(sqlite3_file* file) {
  return *reinterpret_cast<File*>(file);
}

sqlite3_int64 size_of(File& file) {
  sqlite3_int64 size = 0;
  file.real->pMethods->xFileSize(file.real, &size);
  return size;
}

void remember(File& file, sqlite3_int64 offset, int count) {
  Undo undo{offset, std::vector<char>(static_cast<std::size_t>(count)), size_of(file)};
  // A short read fills up with zeros; the size is put back as well.
  file.real->pMethods->xRead(file.real, undo.before.data(), count, offset);
  file.undo->push_back(std::move(undo));
}

void lose_unsynced() {
  for (File* file : open_files) {
    for (auto undo = file->undo->rbegin(); undo != file->undo->rend(); ++undo) {
      file->real->pMethods->xWrite(file->real, undo->before.data(), static_cast<int>(undo->before.size()),
                                   undo->offset);
      file->real->pMethods->xTruncate(file->real, undo->size_before);
    }
    file->undo->clear();
  }
}

/// Counts one changing operation; true where it may go on.
bool works() {
  if (failure.has_failed) return false;
  failure.has_failed = failure.just_failed = ++failure.operations == failure.at;
  return !failure.has_failed;
}

/// The operation fails. Where it is the one at which the power goes, the files become what that leaves of
/// them.
int fails(int code) {
  if (failure.disk_full) return SQLITE_FULL;
  if (std::exchange(failure.just_failed, false)) {
    if (failure.unsynced == FailingFileSystem::Unsynced::lost) lose_unsynced();
    if (failure.then) failure.then();
  }
  return code;
}

int close_file(sqlite3_file* file) {
  File& f = of(file);
  std::erase(open_files, &f);
  const int result = f.real->pMethods ? f.real->pMethods->xClose(f.real) : SQLITE_OK;
  delete f.undo;
  sqlite3_free(f.real);
  return result;
}

int read_file(sqlite3_file* file, void* into, int count, sqlite3_int64 offset) {
  return of(file).real->pMethods->xRead(of(file).real, into, count, offset);
}

int write_file(sqlite3_file* file, const void* from, int count, sqlite3_int64 offset) {
  File& f = of(file);
  if (works()) {
    remember(f, offset, count);
    return f.real->pMethods->xWrite(f.real, from, count, offset);
  }
  if (failure.just_failed && !failure.disk_full &&
      failure.unsynced == FailingFileSystem::Unsynced::half_of_the_last) {
    f.real->pMethods->xWrite(f.real, from, count / 2, offset);
  }
  return fails(SQLITE_IOERR_WRITE);
}

int truncate_file(sqlite3_file* file, sqlite3_int64 size) {
  File& f = of(file);
  if (!works()) return fails(SQLITE_IOERR_TRUNCATE);
  const sqlite3_int64 before = size_of(f);
  if (before > size) remember(f, size, static_cast<int>(before - size));
  return f.real->pMethods->xTruncate(f.real, size);
}

int sync_file(sqlite3_file* file, int) {
  if (!works()) return fails(SQLITE_IOERR_FSYNC);
  // What is synced is safe from this power cut; the real disk need not be asked, which would take its time.
  of(file).undo->clear();
  return SQLITE_OK;
}

int file_size(sqlite3_file* file, sqlite3_int64* size) {
  return of(file).real->pMethods->xFileSize(of(file).real, size);
}
int lock_file(sqlite3_file* file, int kind) {
  return of(file).real->pMethods->xLock(of(file).real, kind);
}
int unlock_file(sqlite3_file* file, int kind) {
  return of(file).real->pMethods->xUnlock(of(file).real, kind);
}
int check_lock(sqlite3_file* file, int* out) {
  return of(file).real->pMethods->xCheckReservedLock(of(file).real, out);
}
int control_file(sqlite3_file* file, int op, void* arg) {
  return of(file).real->pMethods->xFileControl(of(file).real, op, arg);
}
int sector_size(sqlite3_file* file) {
  return of(file).real->pMethods->xSectorSize(of(file).real);
}
int characteristics(sqlite3_file* file) {
  return of(file).real->pMethods->xDeviceCharacteristics(of(file).real);
}
int map_shared(sqlite3_file* file, int page, int size, int extend, void volatile** at) {
  return of(file).real->pMethods->xShmMap(of(file).real, page, size, extend, at);
}
int lock_shared(sqlite3_file* file, int offset, int n, int flags) {
  return of(file).real->pMethods->xShmLock(of(file).real, offset, n, flags);
}
void barrier_shared(sqlite3_file* file) {
  of(file).real->pMethods->xShmBarrier(of(file).real);
}
int unmap_shared(sqlite3_file* file, int remove) {
  return of(file).real->pMethods->xShmUnmap(of(file).real, remove);
}

const sqlite3_io_methods kMethods = {
    2,           close_file,     read_file,    write_file,   truncate_file, sync_file,       file_size,
    lock_file,   unlock_file,    check_lock,   control_file, sector_size,   characteristics, map_shared,
    lock_shared, barrier_shared, unmap_shared, nullptr,      nullptr};

sqlite3_vfs* real_system() {
  return sqlite3_vfs_find(nullptr);
}

int open_file(sqlite3_vfs*, const char* name, sqlite3_file* file, int flags, int* out_flags) {
  File& f = *new (file) File;
  f.real = static_cast<sqlite3_file*>(sqlite3_malloc(real_system()->szOsFile));
  if (f.real == nullptr) return SQLITE_NOMEM;
  std::memset(f.real, 0, static_cast<std::size_t>(real_system()->szOsFile));
  const int result = real_system()->xOpen(real_system(), name, f.real, flags, out_flags);
  if (result != SQLITE_OK) {
    sqlite3_free(f.real);
    f.base.pMethods = nullptr;
    return result;
  }
  f.undo = new std::vector<Undo>;
  f.base.pMethods = &kMethods;
  open_files.push_back(&f);
  return SQLITE_OK;
}

int delete_file(sqlite3_vfs*, const char* name, int sync) {
  return works() ? real_system()->xDelete(real_system(), name, sync) : fails(SQLITE_IOERR_DELETE);
}

void register_system() {
  static sqlite3_vfs system = *real_system();
  system.szOsFile = sizeof(File);
  system.zName = kName;
  system.pNext = nullptr;
  system.xOpen = open_file;
  system.xDelete = delete_file;
  sqlite3_vfs_register(&system, 0);
}

}  // namespace

void use_clock(std::function<Instant()> clock) {
  clock_in_use() = std::move(clock);
}

Instant now() {
  if (clock_in_use()) return clock_in_use()();
  return std::chrono::time_point_cast<Millis>(std::chrono::system_clock::now());
}

void use_wait(Millis wait) {
  wait_in_use = wait;
}
Millis wait_for_lock() {
  return wait_in_use;
}

FailingFileSystem::FailingFileSystem() {
  if (sqlite3_vfs_find(kName) == nullptr) register_system();
  failure = {};
  in_use = true;
}
FailingFileSystem::~FailingFileSystem() {
  failure = {};
  in_use = false;
}
void FailingFileSystem::cut_at(std::int64_t number, Unsynced unsynced, std::function<void()> then) {
  failure = {};
  failure.at = number;
  failure.unsynced = unsynced;
  failure.then = std::move(then);
}
void FailingFileSystem::full_at(std::int64_t number) {
  failure = {};
  failure.at = number;
  failure.disk_full = true;
}
void FailingFileSystem::restore() {
  failure = {};
}
std::int64_t FailingFileSystem::operations() const {
  return failure.operations;
}
bool FailingFileSystem::has_failed() const {
  return failure.has_failed;
}

const char* file_system_name() {
  return in_use ? kName : nullptr;
}

}  // namespace scourbook::store
