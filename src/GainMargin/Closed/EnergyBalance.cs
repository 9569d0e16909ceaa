using System.Collections.Immutable;
using System.Globalization;
using System.Numerics;
using System.Text;
using System.Text.Json.Serialization;
using GainMargin.Numerics;
using MathNet.Numerics.LinearAlgebra;

namespace GainMargin;

/// <summary>Net work of one loop over a cycle of the mode, as a fraction of the energy of the motion.</summary>
/// <param name="Loop">Name of the loop.</param>
/// <param name="Work">Work fed into the motion; negative where the loop takes energy out.</param>
public readonly record struct LoopWork(string Loop, double Work);

/// <summary>
/// Where the energy of the motion comes from and goes to over one cycle of the mode <c>v</c> at <c>s = iω</c>:
/// <c>π[−ω·vᴴD_sym v − Im(vᴴK_skew v) + ω²·Im(vᴴM_skew v)] = 0</c>. All entries are fractions of the energy of the motion,
/// <c>½ω²vᴴM_sym v</c>, twice its mean kinetic energy; symmetric stiffness and mass and the gyroscopic part do no net work.
/// </summary>
/// <remarks>
/// V. V. Bolotin, Nonconservative Problems of the Theory of Elastic Stability, Pergamon 1963, ch. 1 (from memory), for the
/// work of circulatory forces.
/// </remarks>
public sealed class EnergyBalance
{
    [JsonConstructor]
    internal EnergyBalance(double dissipative, double circulatory, double skewMass, double structure, ImmutableArray<LoopWork> loops)
    {
        Dissipative = dissipative;
        Circulatory = circulatory;
        SkewMass = skewMass;
        Structure = structure;
        Loops = loops;
    }

    /// <summary>Work of the symmetric damping; negative where it takes energy out.</summary>
    public double Dissipative { get; }

    /// <summary>Work of the skew stiffness.</summary>
    public double Circulatory { get; }

    /// <summary>Work of the skew mass (acceleration feedback).</summary>
    public double SkewMass { get; }

    /// <summary>Work of the structure's own damping and skew stiffness.</summary>
    public double Structure { get; }

    /// <summary>Work of each loop.</summary>
    public ImmutableArray<LoopWork> Loops { get; }

    /// <summary>What is left over; zero but for rounding at a flutter onset.</summary>
    [JsonIgnore]
    public double Residual => Dissipative + Circulatory + SkewMass;

    /// <summary>The works in per cent of the energy of the motion.</summary>
    public override string ToString()
    {
        var text = new StringBuilder("work per cycle, % of the energy of the motion: ");
        text.Append("dissipative ").Append(Percent(Dissipative)).Append(", circulatory ").Append(Percent(Circulatory));
        if (SkewMass != 0)
        {
            text.Append(", skew mass ").Append(Percent(SkewMass));
        }

        text.Append("; by origin: structure ").Append(Percent(Structure));
        foreach (var loop in Loops)
        {
            text.Append(", ").Append(loop.Loop).Append(' ').Append(Percent(loop.Work));
        }

        return text.ToString();
    }

    internal static EnergyBalance Of(ClosedLoop closed, double omega, Complex[] v)
    {
        var matrices = closed.Matrices;
        double kinetic = 0.5 * omega * omega * Form(matrices.Mass, v).Real;
        double Share(double work) => kinetic == 0 ? 0 : work / kinetic;
        var loops = ImmutableArray.CreateBuilder<LoopWork>();
        var zero = matrices.Mass * 0;
        for (int k = 0; k < closed.Law.Loops.Length; k++)
        {
            var c = closed.Pencil.CouplingOf(k, closed.Gains);
            double work = Share(Work(closed.Pencil.Added(zero, c.Mass), closed.Pencil.Added(zero, c.Damping), closed.Pencil.Added(zero, c.Stiffness), omega, v));
            loops.Add(new LoopWork(closed.Law.Loops[k].Loop.Name, work));
        }

        double dissipative = Share(-Math.PI * omega * Form(Dense.SymmetricPart(matrices.Damping), v).Real);
        double circulatory = Share(-Math.PI * Form(Dense.SkewPart(matrices.Stiffness), v).Imaginary);
        double skewMass = Share(Math.PI * omega * omega * Form(Dense.SkewPart(matrices.Mass), v).Imaginary);
        var open = closed.Pencil.Open;
        return new EnergyBalance(dissipative, circulatory, skewMass, Share(Work(open.Mass, open.Damping, open.Stiffness, omega, v)), loops.ToImmutable());
    }

    private static double Work(Matrix<double> m, Matrix<double> d, Matrix<double> k, double omega, Complex[] v)
        => (-Math.PI * omega * Form(d, v).Real) - (Math.PI * Form(k, v).Imaginary) + (Math.PI * omega * omega * Form(m, v).Imaginary);

    /// <summary><c>vᴴAv</c>: its real part is that of the symmetric part, its imaginary part <c>1/i</c> times that of the skew part.</summary>
    private static Complex Form(Matrix<double> a, Complex[] v)
    {
        var sum = Complex.Zero;
        for (int i = 0; i < v.Length; i++)
        {
            var row = Complex.Zero;
            for (int j = 0; j < v.Length; j++)
            {
                row += a[i, j] * v[j];
            }

            sum += Complex.Conjugate(v[i]) * row;
        }

        return sum;
    }

    private static string Percent(double fraction) => (100 * fraction).ToString("+0.###;-0.###;0", CultureInfo.InvariantCulture);
}
