using System.Collections.Immutable;
using GainMargin.Numerics;

namespace GainMargin;

/// <summary>
/// The loops of a controller with their gains. In a cascade the gain of the outer loop is multiplied by that of the inner
/// one, as in a drive whose position controller commands a velocity. Immutable; <c>With…</c> returns a changed copy.
/// </summary>
public sealed class ControlLaw
{
    private readonly ImmutableDictionary<string, string> _innerOf;

    private ControlLaw(ImmutableArray<LoopSetting> loops, ImmutableDictionary<string, string> innerOf)
    {
        Loops = loops;
        _innerOf = innerOf;
    }

    /// <summary>The loops in the order given.</summary>
    public ImmutableArray<LoopSetting> Loops { get; }

    /// <summary>A law of loops side by side.</summary>
    /// <param name="loops">Loops with their gains.</param>
    /// <exception cref="ArgumentException">No loop, a name used twice, a gain that is not finite.</exception>
    public static ControlLaw Of(params ReadOnlySpan<LoopSetting> loops) => Checked([.. loops], ImmutableDictionary<string, string>.Empty);

    /// <summary>A law of two loops in cascade: the gain of the outer one acts multiplied by that of the inner one.</summary>
    /// <param name="inner">The inner loop, such as rate.</param>
    /// <param name="outer">The outer loop, such as position.</param>
    /// <exception cref="ArgumentException">Both are the same loop, or a gain is not finite.</exception>
    public static ControlLaw Cascade(LoopSetting inner, LoopSetting outer)
    {
        inner.Check(nameof(inner));
        outer.Check(nameof(outer));
        return inner.Loop.Name == outer.Loop.Name
            ? throw new ArgumentException($"Loop \"{inner.Loop.Name}\" cannot be in cascade with itself.", nameof(outer))
            : Checked([inner, outer], ImmutableDictionary<string, string>.Empty.Add(outer.Loop.Name, inner.Loop.Name));
    }

    /// <summary>The same law with further loops beside it.</summary>
    /// <param name="loops">Loops with their gains.</param>
    /// <exception cref="ArgumentException">A name used twice, or a gain that is not finite.</exception>
    public ControlLaw With(params ReadOnlySpan<LoopSetting> loops) => Checked([.. Loops, .. loops], _innerOf);

    /// <summary>The same law with one gain changed.</summary>
    /// <param name="loop">Name of the loop.</param>
    /// <param name="gain">The number typed into the drive.</param>
    /// <exception cref="ArgumentException">There is no such loop, or the gain is not finite.</exception>
    public ControlLaw WithGain(string loop, double gain)
    {
        int i = IndexOf(loop);
        return double.IsFinite(gain)
            ? new ControlLaw(Loops.SetItem(i, Loops[i] with { Gain = gain }), _innerOf)
            : throw new ArgumentOutOfRangeException(nameof(gain), gain, $"The gain of loop \"{loop}\" is {Guard.Show(gain)}; it must be finite.");
    }

    /// <summary>The gain of one loop, as typed into the drive.</summary>
    /// <param name="loop">Name of the loop.</param>
    /// <exception cref="ArgumentException">There is no such loop.</exception>
    public double GainOf(string loop) => Loops[IndexOf(loop)].Gain;

    /// <summary>Name of the loop whose gain multiplies that of <paramref name="loop"/>, or <see langword="null"/>.</summary>
    /// <param name="loop">Name of the loop.</param>
    /// <exception cref="ArgumentException">There is no such loop.</exception>
    public string? InnerOf(string loop)
    {
        IndexOf(loop);
        return _innerOf.GetValueOrDefault(loop);
    }

    /// <summary>The loops with their gains.</summary>
    public override string ToString()
        => string.Join(", ", Loops.Select(l => _innerOf.TryGetValue(l.Loop.Name, out string? inner) ? $"{l} × {inner}" : l.ToString()));

    internal int IndexOf(string loop)
    {
        Guard.NotNull(loop);
        for (int i = 0; i < Loops.Length; i++)
        {
            if (Loops[i].Loop.Name == loop)
            {
                return i;
            }
        }

        throw new ArgumentException($"There is no loop \"{loop}\"; the loops are {string.Join(", ", Loops.Select(l => $"\"{l.Loop.Name}\""))}.", nameof(loop));
    }

    private static ControlLaw Checked(ImmutableArray<LoopSetting> loops, ImmutableDictionary<string, string> innerOf)
    {
        if (loops.IsEmpty)
        {
            throw new ArgumentException("A control law needs at least one loop.", nameof(loops));
        }

        var names = new HashSet<string>(StringComparer.Ordinal);
        foreach (var setting in loops)
        {
            setting.Check(nameof(loops));
            if (!names.Add(setting.Loop.Name))
            {
                throw new ArgumentException($"The loop name \"{setting.Loop.Name}\" occurs twice.", nameof(loops));
            }
        }

        return new ControlLaw(loops, innerOf);
    }
}
