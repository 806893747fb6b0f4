#pragma once
// Owned arrays for numeric data: cache-line aligned, uninitialised, and counted in a ledger so that the report can state
// the engine's peak memory.
#include <array>
#include <atomic>
#include <cstddef>
#include <cstdint>
#include <mutex>
#include <type_traits>
#include <utility>

namespace farsum {

/// Bytes held now and at most by the arrays of one solver. Keeps a few large blocks that were given back for the next array of
/// that size: the first touch of fresh memory costs more than many a pass over it.
class MemoryLedger {
 public:
  MemoryLedger() = default;
  MemoryLedger(const MemoryLedger&) = delete;
  MemoryLedger& operator=(const MemoryLedger&) = delete;
  ~MemoryLedger();

  /// A block aligned to a cache line, a large one to huge pages. Throws std::bad_alloc. Thread-safe.
  void* take(std::size_t bytes);
  /// Gives back a block of take() with the same number of bytes.
  void give_back(void* block, std::size_t bytes) noexcept;

  void add(std::uint64_t bytes) noexcept {
    const std::uint64_t now = current_.fetch_add(bytes, std::memory_order_relaxed) + bytes;
    std::uint64_t peak = peak_.load(std::memory_order_relaxed);
    while (now > peak && !peak_.compare_exchange_weak(peak, now, std::memory_order_relaxed)) {
    }
  }
  void remove(std::uint64_t bytes) noexcept { current_.fetch_sub(bytes, std::memory_order_relaxed); }
  std::uint64_t current() const noexcept { return current_.load(std::memory_order_relaxed); }
  std::uint64_t peak() const noexcept { return peak_.load(std::memory_order_relaxed); }
  void restart_peak() noexcept { peak_.store(current(), std::memory_order_relaxed); }

 private:
  struct Kept {
    void* block = nullptr;
    std::size_t bytes = 0;
  };
  static constexpr std::size_t kKeptBlocks = 6;

  std::atomic<std::uint64_t> current_{0}, peak_{0};
  std::mutex guard_;
  std::array<Kept, kKeptBlocks> kept_{};
};

/// Counts memory that an array of another kind holds, for as long as this lives.
class LedgerShare {
 public:
  LedgerShare() = default;
  LedgerShare(MemoryLedger& ledger, std::uint64_t bytes) : ledger_(&ledger), bytes_(bytes) { ledger.add(bytes); }
  LedgerShare(LedgerShare&& other) noexcept : ledger_(std::exchange(other.ledger_, nullptr)), bytes_(other.bytes_) {}
  LedgerShare& operator=(LedgerShare&& other) noexcept {
    std::swap(ledger_, other.ledger_);
    std::swap(bytes_, other.bytes_);
    return *this;
  }
  ~LedgerShare() {
    if (ledger_) ledger_->remove(bytes_);
  }

 private:
  MemoryLedger* ledger_ = nullptr;
  std::uint64_t bytes_ = 0;
};

/// Fixed-size array of trivial elements, aligned to a cache line, contents undefined at first.
template <class T>
class AlignedArray {
  static_assert(std::is_trivially_copyable_v<T> && std::is_trivially_destructible_v<T>);

 public:
  AlignedArray() = default;
  AlignedArray(MemoryLedger& ledger, std::size_t size) : ledger_(&ledger), size_(size) {
    if (size == 0) return;
    data_ = static_cast<T*>(ledger.take(size * sizeof(T)));
  }
  AlignedArray(AlignedArray&& other) noexcept
      : ledger_(other.ledger_), data_(std::exchange(other.data_, nullptr)), size_(std::exchange(other.size_, 0)) {}
  AlignedArray& operator=(AlignedArray&& other) noexcept {
    std::swap(ledger_, other.ledger_);
    std::swap(data_, other.data_);
    std::swap(size_, other.size_);
    return *this;
  }
  ~AlignedArray() {
    if (!data_) return;
    ledger_->give_back(data_, size_ * sizeof(T));
  }

  T* data() noexcept { return data_; }
  const T* data() const noexcept { return data_; }
  std::size_t size() const noexcept { return size_; }
  bool empty() const noexcept { return size_ == 0; }
  T& operator[](std::size_t i) noexcept { return data_[i]; }
  const T& operator[](std::size_t i) const noexcept { return data_[i]; }
  T* begin() noexcept { return data_; }
  T* end() noexcept { return data_ + size_; }
  const T* begin() const noexcept { return data_; }
  const T* end() const noexcept { return data_ + size_; }

 private:
  MemoryLedger* ledger_ = nullptr;
  T* data_ = nullptr;
  std::size_t size_ = 0;
};

}  // namespace farsum
