// Package preferred holds the preferred numbers of IEC 60063, the values in which resistors, capacitors and
// inductors are sold.
//
// Every value is the number that its decimal literal denotes: Nearest(4.6e-6) in E12 is 4.7e-6 to the last bit,
// so values compare with == and print as short as they are written.
package preferred
