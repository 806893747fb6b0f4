#include "io/openpmd/copy_records.hpp"

#include <algorithm>
#include <optional>

#include "io/openpmd/known_records.hpp"

namespace farsum::io::openpmd {
namespace {

using hdf5::join;

const Quantity kAnyQuantity{dimension::kNone, false, 1.0};

/// Rows of the input in the order of the output: runs between dropped rows.
class KeptRows {
 public:
  explicit KeptRows(const SpeciesRange& range) : dropped_(range.dropped_rows) {}

  /// Calls read(first input row, count, position in the output slab) for the runs of the next `count` output rows.
  template <class Read>
  void next(std::size_t count, Read&& read) {
    std::size_t done = 0;
    while (done < count) {
      while (at_ < dropped_.size() && dropped_[at_] == row_) {
        ++at_;
        ++row_;
      }
      const std::uint64_t end = at_ < dropped_.size() ? dropped_[at_] : row_ + count;
      const std::size_t run = static_cast<std::size_t>(std::min<std::uint64_t>(count - done, end - row_));
      read(row_, run, done);
      row_ += run;
      done += run;
    }
  }

 private:
  const std::vector<std::uint64_t>& dropped_;
  std::size_t at_ = 0;
  std::uint64_t row_ = 0;
};

/// One input component, with its offset if there is one. Reads windows of rows, so that many short runs cost few calls.
class Source {
 public:
  Source(const hdf5::InputFile& file, const ExtraRecord& record, const std::string& axis) {
    main_.emplace(file, record.object, axis.empty() ? record.object : join(record.object, axis), kAnyQuantity);
    if (record.offset.empty()) return;
    const std::string object = axis.empty() ? record.offset : join(record.offset, axis);
    if (is_component(file, object)) offset_.emplace(file, record.offset, object, kAnyQuantity);
  }

  const Component& main() const { return *main_; }
  bool is_constant() const { return main_->is_constant() && (!offset_ || offset_->is_constant()); }
  double constant() const { return main_->constant() + (offset_ ? offset_->constant() : 0.0); }
  /// Whole numbers without unit are copied as such, to keep every bit.
  bool is_integer() const {
    return !is_constant() && !offset_ && main_->unit() == 1.0 && main_->data()->number_kind() != hdf5::NumberKind::floating;
  }

  void read(std::uint64_t start, std::size_t count, double* values) {
    main_->read(start, count, values);
    if (!offset_) return;
    scratch_.resize(count);
    offset_->read(start, count, scratch_.data());
    for (std::size_t i = 0; i < count; ++i) values[i] += scratch_[i];
  }

 private:
  std::optional<Component> main_, offset_;
  std::vector<double> scratch_;
};

template <class Value, class Read>
class Window {
 public:
  Window(std::uint64_t rows, Read read) : rows_(rows), read_(std::move(read)) {}
  void copy(std::uint64_t row, std::size_t count, Value* out) {
    while (count > 0) {
      if (row < start_ || row >= start_ + values_.size()) {
        start_ = row;
        values_.resize(static_cast<std::size_t>(std::min<std::uint64_t>(hdf5::kSlab, rows_ - row)));
        read_(start_, values_.size(), values_.data());
      }
      const std::size_t run = std::min<std::size_t>(count, static_cast<std::size_t>(start_ + values_.size() - row));
      out = std::copy_n(values_.data() + (row - start_), run, out);
      row += run;
      count -= run;
    }
  }

 private:
  std::uint64_t rows_, start_ = 0;
  Read read_;
  std::vector<Value> values_;
};

template <class Integer>
void copy_integers(const Source& source, const std::string& name, const RecordStyle* style, const SpeciesRange& range,
                   SpeciesOutput& output) {
  KeptRows rows(range);
  const auto read = [&source](std::uint64_t start, std::size_t count, Integer* values) {
    source.main().data()->read(start, count, values);
  };
  Window<Integer, decltype(read)> window(range.stored, read);
  output.integers<Integer>(name, style, [&](std::size_t, std::size_t count, Integer* values) {
    rows.next(count, [&](std::uint64_t row, std::size_t run, std::size_t at) { window.copy(row, run, values + at); });
  });
}

void copy_floats(Source& source, const std::string& name, const RecordStyle* style, const SpeciesRange& range,
                 SpeciesOutput& output) {
  KeptRows rows(range);
  const auto read = [&source](std::uint64_t start, std::size_t count, double* values) { source.read(start, count, values); };
  Window<double, decltype(read)> window(range.stored, read);
  const ColumnFill fill = [&](std::size_t, std::size_t count, double* buffer) {
    rows.next(count, [&](std::uint64_t row, std::size_t run, std::size_t at) { window.copy(row, run, buffer + at); });
    return buffer;
  };
  if (style) return output.scalar(name, *style, fill);
  output.component(name, fill);
}

void copy_component(Source& source, const std::string& name, const RecordStyle* style, const SpeciesRange& range,
                    SpeciesOutput& output) {
  if (source.is_constant()) {
    if (style) return output.scalar_constant(name, *style, source.constant());
    return output.component_constant(name, source.constant());
  }
  if (!source.is_integer()) return copy_floats(source, name, style, range, output);
  if (source.main().data()->number_kind() == hdf5::NumberKind::signed_integer) {
    return copy_integers<std::int64_t>(source, name, style, range, output);
  }
  copy_integers<std::uint64_t>(source, name, style, range, output);
}

}  // namespace

void copy_records(const hdf5::InputFile& file, const std::vector<ExtraRecord>& records, const SpeciesRange& range,
                  SpeciesOutput& output) {
  for (const ExtraRecord& record : records) {
    const KnownRecord* known = find_known_record(record.name);
    const MacroRule rule = read_macro_rule(file, record.object, known ? known->rule : MacroRule{});
    const Dimension usual = known ? known->dimension : dimension::kNone;
    RecordStyle style{usual, rule.macro_weighted, rule.weighting_power, nullptr};
    if (record.axes.empty()) {
      Source source(file, record, {});
      style.dimension = source.main().stated_dimension().value_or(usual);
      copy_component(source, record.name, &style, range, output);
      continue;
    }
    const Source first(file, record, record.axes.front());
    style.dimension = first.main().stated_dimension().value_or(usual);
    output.vector_group(record.name, style);
    for (const std::string& axis : record.axes) {
      Source source(file, record, axis);
      copy_component(source, record.name + "/" + axis, nullptr, range, output);
    }
  }
}

}  // namespace farsum::io::openpmd
