#include "replay/replay.hpp"

namespace scourbook::replay {

store::ReplayRecord make_replay(const store::Book& book, const history::View& view, Instant from,
                                Instant until,
                                const std::function<void(std::int64_t, std::int64_t)>& progress) {
  const Replayer replayer(book, view);
  store::ReplayRecord record;
  record.station = view.station;
  record.edition = view.edition->number;
  record.data_version = view.data_version;
  record.method = store::kMethodVersion;
  record.from = from;
  record.until = until;
  if (until <= from) return record;
  const UtcMonth first = utc_month_of(from);
  const UtcMonth end{utc_month_of(until - Millis{1}).number + 1};
  const int all = end.number - first.number;
  int done = 0;
  replayer.run(start_of(first), start_of(end), [&](const FlowBlock& block) {
    record.months.push_back({block.month, static_cast<std::int64_t>(block.time_ms.size()), digest(block)});
    done = block.month.number - first.number + 1;
    if (progress) progress(done, all);
  });
  if (progress && done < all) progress(all, all);  // months without readings at the end
  return record;
}

}  // namespace scourbook::replay
