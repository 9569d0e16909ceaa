using System.Collections;
using System.Collections.Immutable;
using System.Runtime.CompilerServices;
using GainMargin.Numerics;

namespace GainMargin;

/// <summary>
/// Names of the degrees of freedom (or of the points) of a structure, in the order of rows and columns. Unique, not
/// blank, compared by ordinal. Two lists with the same names in the same order are equal.
/// </summary>
[CollectionBuilder(typeof(DofNames), nameof(Of))]
public sealed class DofNames : IReadOnlyList<string>, IEquatable<DofNames>
{
    private readonly ImmutableArray<string> _names;
    private readonly Dictionary<string, int> _index;

    private DofNames(ImmutableArray<string> names, Dictionary<string, int> index)
    {
        _names = names;
        _index = index;
    }

    /// <summary>Number of names.</summary>
    public int Count => _names.Length;

    /// <summary>The name at a position.</summary>
    /// <param name="index">Position from zero.</param>
    /// <exception cref="ArgumentOutOfRangeException">There is no such position.</exception>
    public string this[int index]
        => (uint)index < (uint)_names.Length
            ? _names[index]
            : throw new ArgumentOutOfRangeException(nameof(index), index, Guard.Invariant($"There is no name {index}; there are {_names.Length}."));

    /// <summary>Makes the list.</summary>
    /// <param name="names">The names in order.</param>
    /// <exception cref="ArgumentException">A name is blank or occurs twice.</exception>
    public static DofNames Of(params ReadOnlySpan<string> names)
    {
        var index = new Dictionary<string, int>(names.Length, StringComparer.Ordinal);
        for (int i = 0; i < names.Length; i++)
        {
            if (string.IsNullOrWhiteSpace(names[i]))
            {
                throw new ArgumentException(Guard.Invariant($"Name {i} is blank."), nameof(names));
            }

            if (!index.TryAdd(names[i], i))
            {
                throw new ArgumentException(Guard.Invariant($"The name \"{names[i]}\" occurs twice, at {index[names[i]]} and {i}."), nameof(names));
            }
        }

        return new DofNames([.. names], index);
    }

    /// <summary>Position of a name.</summary>
    /// <param name="name">The name to look up.</param>
    /// <exception cref="ArgumentException">There is no such name; the message lists the names there are.</exception>
    public int IndexOf(string name)
        => TryGetIndex(name, out int index)
            ? index
            : throw new ArgumentException($"There is no \"{name}\"; the names are {this}.", nameof(name));

    /// <summary>Position of a name, if there is one.</summary>
    /// <param name="name">The name to look up.</param>
    /// <param name="index">Its position, or −1.</param>
    public bool TryGetIndex(string name, out int index)
    {
        bool found = _index.TryGetValue(Guard.NotNull(name), out index);
        index = found ? index : -1;
        return found;
    }

    /// <inheritdoc/>
    public IEnumerator<string> GetEnumerator() => ((IEnumerable<string>)_names).GetEnumerator();

    IEnumerator IEnumerable.GetEnumerator() => GetEnumerator();

    /// <inheritdoc/>
    public bool Equals(DofNames? other) => other is not null && (ReferenceEquals(this, other) || _names.SequenceEqual(other._names));

    /// <inheritdoc/>
    public override bool Equals(object? obj) => Equals(obj as DofNames);

    /// <inheritdoc/>
    public override int GetHashCode()
    {
        var hash = new HashCode();
        foreach (string name in _names)
        {
            hash.Add(name, StringComparer.Ordinal);
        }

        return hash.ToHashCode();
    }

    /// <summary>The names, quoted, up to the first dozen.</summary>
    public override string ToString()
        => string.Join(", ", _names.Take(12).Select(n => $"\"{n}\"")) + (Count > 12 ? Guard.Invariant($", … ({Count} in all)") : "");
}
