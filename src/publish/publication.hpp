#pragma once
// Making a replay a publication: the figures that go out, rounded, with their uncertainty and flags.

#include <functional>
#include <string>

#include "store/book.hpp"

namespace scourbook::publish {

/// The publication (number 0, without sha256) of a kept replay: its whole station days, values at the
/// readings and day means, rounded as the settings say. Computes the flows anew from the replay's edition,
/// data version and method, and throws StoreError damaged where their digests differ from those kept, refused
/// where the replay holds no whole station day.
/// Published quality: what is only unchecked because it was not published becomes good.
/// `progress(months done, months in all)` may be empty. Settings and the station's clock as known: what was
/// published at act N is made again with `known` N - 1.
[[nodiscard]] store::Publication make_publication(
    const store::Book& book, const store::ReplayRecord& replay,
    const std::function<void(std::int64_t, std::int64_t)>& progress = {}, Known known = {});

/// The number of the newest publication, at most known.act, that covers `time`; nothing where none does.
[[nodiscard]] std::optional<int> publication_at(const store::Book& book, const std::string& station,
                                                Instant time, Known known = {});

enum class PublicationState { published, superseded };
/// superseded: newer publications cover all of its days. `all`: those of its station as known, numbers
/// rising, itself among them.
[[nodiscard]] PublicationState state_of(const store::Publication& publication,
                                        const std::vector<store::Publication>& all);

}  // namespace scourbook::publish
