using System.Numerics;
using System.Text.Json.Serialization;

namespace GainMargin;

/// <summary>The least damped root found inside an interval.</summary>
public sealed class ClosestApproach
{
    [JsonConstructor]
    internal ClosestApproach(double gain, Complex root, double dampingRatio)
    {
        Gain = gain;
        Root = root;
        DampingRatio = dampingRatio;
    }

    /// <summary>Gain at which it was found.</summary>
    public double Gain { get; }

    /// <summary>The root <c>s</c>.</summary>
    public Complex Root { get; }

    /// <summary>Damping ratio <c>ζ = −Re s/|s|</c>, negative where it grows; zero where it cannot be told from zero.</summary>
    public double DampingRatio { get; }

    /// <summary>Frequency <c>|Im s|</c>.</summary>
    [JsonIgnore]
    public Frequency Frequency => Frequency.Of(Root.Imaginary);
}
