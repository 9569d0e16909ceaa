using GainMargin.Numerics;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin;

/// <summary>
/// One feedback loop without its gain: sensor <c>s</c>, actuator <c>b</c> and ratios, force <c>−g·b·(p·y + v·y′ + a·y″)</c>
/// with <c>y = sᵀq</c>. Immutable.
/// </summary>
public sealed class FeedbackLoop
{
    private FeedbackLoop(string name, Sensor sensor, Actuator actuator, FeedbackRatios ratios)
    {
        Name = name;
        Sensor = sensor;
        Actuator = actuator;
        Ratios = ratios;
    }

    /// <summary>Name by which the loop is screened.</summary>
    public string Name { get; }

    /// <summary>What it sees.</summary>
    public Sensor Sensor { get; }

    /// <summary>What it pushes.</summary>
    public Actuator Actuator { get; }

    /// <summary>Its ratios.</summary>
    public FeedbackRatios Ratios { get; }

    /// <summary>
    /// Whether sensor and actuator share one pattern, up to a positive factor. Only then does a positive gain leave the
    /// closed-loop matrices symmetric.
    /// </summary>
    public bool IsCollocated => WeightedPattern.ArePositiveMultiples(Sensor.Weights, Actuator.Weights);

    /// <summary>
    /// What one unit of gain and ratio adds, <c>b·sᵀ</c>: rows are the points driven, columns the points sensed.
    /// </summary>
    public NamedMatrix Coupling
    {
        get
        {
            var b = Actuator.Weights;
            var s = Sensor.Weights;
            return new NamedMatrix(
                DofNames.Of([.. b.Select(w => w.Point)]), DofNames.Of([.. s.Select(w => w.Point)]),
                DenseMatrix.Create(b.Length, s.Length, (i, j) => b[i].Weight * s[j].Weight));
        }
    }

    /// <summary>Makes a loop.</summary>
    /// <param name="name">Name by which it is screened.</param>
    /// <param name="sensor">What it sees.</param>
    /// <param name="actuator">What it pushes.</param>
    /// <param name="ratios">Ratios of position, rate and acceleration.</param>
    /// <exception cref="ArgumentException">The name is blank, a ratio is not finite, or all are zero.</exception>
    public static FeedbackLoop Create(string name, Sensor sensor, Actuator actuator, FeedbackRatios ratios)
    {
        Guard.Name(name);
        Guard.NotNull(sensor);
        Guard.NotNull(actuator);
        foreach (var (what, ratio) in new[]
        {
            (nameof(ratios.Position), ratios.Position), (nameof(ratios.Rate), ratios.Rate), (nameof(ratios.Acceleration), ratios.Acceleration),
        })
        {
            if (!double.IsFinite(ratio))
            {
                throw new ArgumentOutOfRangeException(nameof(ratios), ratio, $"Loop \"{name}\": {what} is {Guard.Show(ratio)}; it must be finite.");
            }
        }

        return ratios == default
            ? throw new ArgumentException($"Loop \"{name}\" has no ratio that is not zero: it would feed nothing back.", nameof(ratios))
            : new FeedbackLoop(name, sensor, actuator, ratios);
    }

    /// <summary>Name, sensor and actuator.</summary>
    public override string ToString() => $"{Name}: {Sensor} → {Actuator}";
}
